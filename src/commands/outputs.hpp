#pragma once

#include <array>
#include <ostream>
#include <streambuf>
#include <string>
#include <vector>

#include "commands/option_groups.hpp"

namespace pathvet::commands {

/// Writes to a file descriptor and remembers the first error.
class DescriptorBuffer : public std::streambuf {
 public:
  explicit DescriptorBuffer(int descriptor);
  DescriptorBuffer(const DescriptorBuffer&) = delete;
  DescriptorBuffer& operator=(const DescriptorBuffer&) = delete;

  [[nodiscard]] int error() const { return error_; }  ///< errno of the first failed write; 0: none

 protected:
  int_type overflow(int_type letter) override;
  int sync() override;

 private:
  bool write_out();

  int descriptor_;
  int error_ = 0;
  std::array<char, 1 << 16> buffer_;
};

/// One output, whole or not at all: a file is written beside its target and takes its name on commit();
/// without that nothing is left of it. Standard output, and targets that are no regular files (a device, a
/// pipe), are written as they come.
class Output {
 public:
  /// `target`: a file or "-". Throws OutputError.
  explicit Output(const std::string& target);
  ~Output();
  Output(const Output&) = delete;
  Output& operator=(const Output&) = delete;

  [[nodiscard]] std::ostream& stream() { return stream_; }
  /// Whether a write has failed so far; for those who'd rather stop early.
  [[nodiscard]] bool failed() const { return buffer_.error() != 0; }
  /// All is on the disk after this. Throws OutputError, or BrokenPipe.
  void finish();
  /// The file gets its name. Precondition: finish() has returned. Throws OutputError.
  void commit();

 private:
  [[noreturn]] void fail(int error) const;

  std::string target_;
  std::string temporary_;  ///< empty: written in place
  int descriptor_;
  DescriptorBuffer buffer_;
  std::ostream stream_;
};

/// What is wrong with the places that outputs go to: a folder that isn't there, a folder itself, an input,
/// the same place twice.
[[nodiscard]] std::vector<std::string> output_problems(const std::vector<OutputRequest>& outputs,
                                                       const std::vector<std::string>& inputs);

/// "FILE:1:1: error: ..." for every input that can't be read at all.
[[nodiscard]] std::vector<std::string> input_problems(const std::vector<std::string>& inputs);

}  // namespace pathvet::commands
