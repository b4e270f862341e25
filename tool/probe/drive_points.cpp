#include "probe/drive_points.h"

#include <cmath>
#include <random>

namespace dextral::probe {

namespace {

class Source {
 public:
  explicit Source(std::size_t seed) : engine_(seed + 1) {}
  double between(double low, double high) { return low + (high - low) * double(engine_() >> 11) * 0x1p-53; }

 private:
  std::mt19937_64 engine_;
};

std::vector<double> unit(Source& source, std::size_t count) {
  std::vector<double> numbers;
  double square = 0;
  for (std::size_t i = 0; i < count; ++i) {
    numbers.push_back(source.between(0.1, 1) * (source.between(-1, 1) < 0 ? -1 : 1));
    square += numbers.back() * numbers.back();
  }
  for (double& number : numbers) number /= std::sqrt(square);
  return numbers;
}

std::vector<double> rotation(Source& source) {
  const std::vector<double> q = unit(source, 4);
  const double w = q[0], x = q[1], y = q[2], z = q[3];
  return {1 - 2 * (y * y + z * z), 2 * (x * y - w * z),     2 * (x * z + w * y),
          2 * (x * y + w * z),     1 - 2 * (x * x + z * z), 2 * (y * z - w * x),
          2 * (x * z - w * y),     2 * (y * z + w * x),     1 - 2 * (x * x + y * y)};
}

std::vector<double> pose(Source& source) {
  const std::vector<double> r = rotation(source);
  return {r[0], r[1], r[2], source.between(-1, 1), r[3], r[4], r[5], source.between(-1, 1),
          r[6], r[7], r[8], source.between(-1, 1), 0,    0,    0,    1};
}

std::vector<double> shaped(Source& source, std::size_t count, bool open) {
  if (count == 3 || count == 4) return unit(source, count);
  if (count == 9) return rotation(source);
  if (count == 16 && !open) return pose(source);
  std::vector<double> numbers = open && count > 9 ? rotation(source) : std::vector<double>();
  while (numbers.size() < count) numbers.push_back(source.between(0.1, 1.2));
  return numbers;
}

std::vector<double> loose(Source& source, std::size_t count, bool positive) {
  std::vector<double> numbers;
  while (numbers.size() < count) numbers.push_back(source.between(positive ? 0.1 : -1, 1));
  return numbers;
}

}  // namespace

Setting touching_point(const Candidate& candidate, const Setting& integers, std::size_t index) {
  Setting setting = integers;
  Source source(index);
  for (std::size_t i = 0; i < candidate.formals.size(); ++i) {
    const Object& object = candidate.formals[i].object;
    std::size_t leaf = 0;
    for (const Bundle& bundle : object.bundles) {
      const std::size_t count = bundle.leaves.size();
      if (!bundle.group.integer) {
        const std::vector<double> numbers =
            index % 2 == 1 ? shaped(source, count, object.open) : loose(source, count, index % 4 == 2);
        for (std::size_t n = 0; n < count; ++n) setting[i][leaf + n] = numbers[n];
      }
      leaf += count;
    }
  }
  return setting;
}

}  // namespace dextral::probe
