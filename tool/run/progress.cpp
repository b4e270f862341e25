#include "run/progress.h"

#include <unistd.h>

#include <algorithm>
#include <cstdio>

namespace dextral::run {

namespace {

using namespace std::chrono_literals;
constexpr std::size_t kWidth = 78;
const char kErase[] = "\r\033[K";

}  // namespace

std::string progress_line(std::size_t done, std::size_t total, const std::string& file, std::size_t width) {
  std::string line = "read " + std::to_string(done) + " of " + std::to_string(total) + ": ";
  std::string name = file;
  std::replace_if(name.begin(), name.end(), [](unsigned char c) { return c < 32 || c >= 127; }, '?');
  if (line.size() + name.size() > width && line.size() + 3 < width)
    name = "..." + name.substr(name.size() - (width - line.size() - 3));
  return (line + name).substr(0, width);
}

Progress::Progress(bool wanted, std::size_t total)
    : active_(wanted && isatty(STDERR_FILENO)), total_(total), next_(std::chrono::steady_clock::now() + 1s) {}

Progress::~Progress() {
  if (written_) std::fputs(kErase, stderr);
}

void Progress::show(std::size_t done, const std::string& file) {
  auto now = std::chrono::steady_clock::now();
  if (!active_ || now < next_) return;
  next_ = now + 100ms;
  written_ = true;
  std::fprintf(stderr, "%s%s", kErase, progress_line(done, total_, file, kWidth).c_str());
  std::fflush(stderr);
}

}  // namespace dextral::run
