#include "commands/outputs.hpp"

#include <fcntl.h>
#include <fmt/format.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstdlib>
#include <cstring>
#include <filesystem>

#include "commands/errors.hpp"

namespace pathvet::commands {
namespace {

namespace fs = std::filesystem;

/// The file that a name leads to, links followed; the name itself where there is none yet.
std::string resolved(const std::string& target) {
  std::error_code ignored;
  const fs::path path = fs::weakly_canonical(fs::absolute(target, ignored), ignored);
  return ignored ? target : path.string();
}

bool is_written_in_place(const std::string& target) {
  std::error_code ignored;
  const fs::file_status status = fs::status(target, ignored);
  return fs::exists(status) && !fs::is_regular_file(status);
}

/// The permissions that the target has, or that a new file would get.
mode_t permissions_for(const std::string& target) {
  constexpr mode_t all_bits = 07777;
  constexpr mode_t everybody = 0666;
  struct stat status {};
  if (::stat(target.c_str(), &status) == 0) return status.st_mode & all_bits;
  const mode_t mask = ::umask(0);
  ::umask(mask);
  return everybody & ~mask;
}

bool is_same_place(const std::string& one, const std::string& other) {
  std::error_code ignored;
  return fs::equivalent(one, other, ignored) || resolved(one) == resolved(other);
}

std::string target_problem(const OutputRequest& output) {
  std::error_code ignored;
  const fs::path target(output.target);
  if (fs::is_directory(target, ignored))
    return fmt::format("{}: '{}' is a folder", output.option, output.target);
  const fs::path folder = fs::path(resolved(output.target)).parent_path();
  if (!fs::is_directory(folder, ignored)) {
    return fmt::format("{}: there is no folder '{}'", output.option,
                       target.has_parent_path() ? target.parent_path().string() : folder.string());
  }
  if (fs::exists(target, ignored) && ::access(output.target.c_str(), W_OK) != 0) {
    return fmt::format("{}: '{}' is not to be written: {}", output.option, output.target,
                       std::strerror(errno));
  }
  if (!is_written_in_place(output.target) && ::access(folder.c_str(), W_OK | X_OK) != 0) {
    return fmt::format("{}: the folder of '{}' is not to be written: {}", output.option, output.target,
                       std::strerror(errno));
  }
  return "";
}

}  // namespace

DescriptorBuffer::DescriptorBuffer(int descriptor) : descriptor_(descriptor) {
  setp(buffer_.data(), buffer_.data() + buffer_.size());
}

DescriptorBuffer::int_type DescriptorBuffer::overflow(int_type letter) {
  if (!write_out()) return traits_type::eof();
  if (traits_type::eq_int_type(letter, traits_type::eof())) return traits_type::not_eof(letter);
  return sputc(traits_type::to_char_type(letter));
}

int DescriptorBuffer::sync() {
  return write_out() ? 0 : -1;
}

bool DescriptorBuffer::write_out() {
  const char* from = pbase();
  while (error_ == 0 && from < pptr()) {
    const ssize_t written = ::write(descriptor_, from, static_cast<std::size_t>(pptr() - from));
    if (written >= 0) {
      from += written;
    } else if (errno != EINTR) {
      error_ = errno;
    }
  }
  setp(buffer_.data(), buffer_.data() + buffer_.size());
  return error_ == 0;
}

namespace {

int open_place(const std::string& target, std::string& temporary) {
  if (target == "-") return STDOUT_FILENO;
  if (is_written_in_place(target)) return ::open(target.c_str(), O_WRONLY | O_CLOEXEC);
  const std::string final_place = resolved(target);
  temporary = (fs::path(final_place).parent_path() / ".pathvet-XXXXXX").string();
  const int descriptor = ::mkstemp(temporary.data());
  if (descriptor >= 0) {
    ::fchmod(descriptor, permissions_for(final_place));
  } else {
    temporary.clear();
  }
  return descriptor;
}

}  // namespace

Output::Output(const std::string& target)
    : target_(target), descriptor_(open_place(target, temporary_)), buffer_(descriptor_), stream_(&buffer_) {
  if (descriptor_ < 0) fail(errno);
}

Output::~Output() {
  if (descriptor_ > STDERR_FILENO) ::close(descriptor_);
  if (!temporary_.empty()) ::unlink(temporary_.c_str());
}

void Output::finish() {
  stream_.flush();
  if (buffer_.error() != 0) fail(buffer_.error());
  if (!stream_) fail(EIO);
  if (!temporary_.empty() && ::fsync(descriptor_) != 0) fail(errno);
  if (descriptor_ <= STDERR_FILENO) return;
  const int closed = ::close(descriptor_);
  descriptor_ = -1;
  if (closed != 0) fail(errno);
}

void Output::commit() {
  if (temporary_.empty()) return;
  if (::rename(temporary_.c_str(), resolved(target_).c_str()) != 0) fail(errno);
  temporary_.clear();
}

void Output::fail(int error) const {
  if (target_ == "-" && error == EPIPE) throw BrokenPipe();
  const std::string place = target_ == "-" ? "standard output" : "'" + target_ + "'";
  throw OutputError(fmt::format("can't write {}: {}", place, std::strerror(error)));
}

std::vector<std::string> output_problems(const std::vector<OutputRequest>& outputs,
                                         const std::vector<std::string>& inputs) {
  std::vector<std::string> problems;
  for (std::size_t i = 0; i < outputs.size(); ++i) {
    const OutputRequest& output = outputs[i];
    if (output.target == "-") continue;
    if (std::string problem = target_problem(output); !problem.empty())
      problems.push_back(std::move(problem));
    for (const std::string& input : inputs) {
      if (!is_same_place(output.target, input)) continue;
      problems.push_back(fmt::format("{}: '{}' is an input file", output.option, output.target));
      break;
    }
    for (std::size_t other = 0; other < i; ++other) {
      if (outputs[other].target == "-" || !is_same_place(output.target, outputs[other].target)) continue;
      problems.push_back(fmt::format("{} and {} go to the same file '{}'", outputs[other].option,
                                     output.option, output.target));
    }
  }
  return problems;
}

std::vector<std::string> input_problems(const std::vector<std::string>& inputs) {
  std::vector<std::string> problems;
  for (const std::string& input : inputs) {
    std::error_code ignored;
    if (fs::is_directory(input, ignored)) {
      problems.push_back(fmt::format("{}:1:1: error: this is a folder; expected a file", input));
    } else if (::access(input.c_str(), R_OK) != 0) {
      problems.push_back(fmt::format("{}:1:1: error: can't be read: {}", input, std::strerror(errno)));
    }
  }
  return problems;
}

}  // namespace pathvet::commands
