#pragma once

#include <boost/program_options/options_description.hpp>
#include <map>
#include <optional>
#include <string>
#include <vector>

namespace pathvet::commands {

using Arguments = std::vector<std::string>;

/// The words of a call, taken apart; every problem that turns up on the way is kept, none is thrown.
class OptionValues {
 public:
  /// Options may stand anywhere; `--` ends them. Names are not guessed from their beginnings; a value may
  /// begin with '-'.
  OptionValues(const Arguments& arguments, const boost::program_options::options_description& known);

  [[nodiscard]] const std::vector<std::string>& positional() const { return positional_; }
  [[nodiscard]] bool has(const std::string& name) const { return given_.count(name) > 0; }
  [[nodiscard]] std::optional<std::string> text(const std::string& name) const;

  /// A finite decimal number; anything else is a problem and reads as none.
  [[nodiscard]] std::optional<double> number(const std::string& name);
  [[nodiscard]] std::optional<int> whole_number(const std::string& name);
  /// Numbers separated by spaces or commas, `count` of them (0: any number, at least one).
  [[nodiscard]] std::optional<std::vector<double>> numbers(const std::string& name, std::size_t count);

  void problem(std::string what) { problems_.push_back(std::move(what)); }
  [[nodiscard]] const std::vector<std::string>& problems() const { return problems_; }

 private:
  void drop_misused(Arguments& words, const boost::program_options::options_description& known);
  void parse(const Arguments& words, const boost::program_options::options_description& known);
  void take(const std::string& name, const std::vector<std::string>& values);

  std::vector<std::string> positional_;
  std::map<std::string, std::string> given_;
  std::vector<std::string> problems_;
};

/// What `setup` of a command yields: usable settings exactly when there are no problems and no help is asked
/// for.
template <typename Settings>
struct Setup {
  Settings settings;
  bool wants_help = false;
  std::vector<std::string> problems;
};

}  // namespace pathvet::commands
