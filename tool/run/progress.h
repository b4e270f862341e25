// A line on the terminal while a run takes long; erased at the end. Nothing is
// written where standard error is no terminal, nor in the first second.
#pragma once

#include <chrono>
#include <string>

namespace dextral::run {

class Progress {
 public:
  Progress(bool wanted, std::size_t total);
  ~Progress();
  Progress(const Progress&) = delete;
  Progress& operator=(const Progress&) = delete;
  void show(std::size_t done, const std::string& file);

 private:
  bool active_ = false;
  bool written_ = false;
  std::size_t total_ = 0;
  std::chrono::steady_clock::time_point next_;
};

// "read 3 of 20: .../nav/attitude.cpp", in at most `width` bytes; control
// characters of the name are replaced.
std::string progress_line(std::size_t done, std::size_t total, const std::string& file, std::size_t width);

}  // namespace dextral::run
