#pragma once

namespace pathvet::commands {

/// From now on the first SIGINT, SIGTERM or SIGHUP asks for a stop and the second one kills; a broken pipe is
/// an error of the write alone.
void handle_signals();

[[nodiscard]] bool stop_requested();

}  // namespace pathvet::commands
