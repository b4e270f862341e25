#include "core/frame.h"

#include <algorithm>

namespace dextral {

namespace {

struct NamedDirection {
  const char* word;
  Direction direction;
};

constexpr NamedDirection kDirections[] = {
    {"north", Direction::north},       {"south", Direction::south},
    {"east", Direction::east},         {"west", Direction::west},
    {"down", Direction::down},         {"up", Direction::up},
    {"forward", Direction::forward},   {"aft", Direction::aft},
    {"right", Direction::right},       {"left", Direction::left},
    {"below", Direction::below},       {"above", Direction::above},
    {"meridian", Direction::meridian}, {"antimeridian", Direction::antimeridian},
    {"quarter", Direction::quarter},   {"antiquarter", Direction::antiquarter},
    {"pole", Direction::pole},         {"antipole", Direction::antipole},
    {"backward", Direction::aft},      {"starboard", Direction::right},
    {"port", Direction::left},
};

// Opposite directions differ in the last bit; two of them are one line.
int line(Direction d) { return int(d) / 2; }

bool of_vehicle(Direction d) { return line(d) == 3 || line(d) == 4 || line(d) == 5; }

// `down` beside forward or right is the vehicle's own down.
void settle_vertical(std::array<Direction, 3>& axes) {
  if (!std::any_of(axes.begin(), axes.end(), of_vehicle)) return;
  for (Direction& d : axes) {
    if (d == Direction::down) d = Direction::below;
    else if (d == Direction::up) d = Direction::above;
  }
}

// Right-handed triples of lines, as built in: north east down; forward right below; the earth's.
Hand hand_of(const std::array<Direction, 3>& axes) {
  std::array<int, 3> place{};
  int sign = 1;
  for (int i = 0; i < 3; ++i) {
    place[std::size_t(i)] = line(axes[std::size_t(i)]) % 3;
    if (int(axes[std::size_t(i)]) % 2) sign = -sign;
  }
  int turn = (place[1] - place[0]) * (place[2] - place[0]) * (place[2] - place[1]);
  return (turn > 0 ? sign : -sign) > 0 ? Hand::right : Hand::left;
}

std::size_t edits(const std::string& a, const std::string& b) {
  std::vector<std::vector<std::size_t>> d(a.size() + 1, std::vector<std::size_t>(b.size() + 1));
  for (std::size_t i = 0; i <= a.size(); ++i) d[i][0] = i;
  for (std::size_t j = 0; j <= b.size(); ++j) d[0][j] = j;
  for (std::size_t i = 1; i <= a.size(); ++i)
    for (std::size_t j = 1; j <= b.size(); ++j) {
      d[i][j] = std::min({d[i - 1][j] + 1, d[i][j - 1] + 1, d[i - 1][j - 1] + (a[i - 1] != b[j - 1])});
      if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1]) d[i][j] = std::min(d[i][j], d[i - 2][j - 2] + 1);
    }
  return d[a.size()][b.size()];
}

}  // namespace

std::string text(const Frame& frame) {
  if (frame.variable) return "?" + frame.name;
  return (frame.own ? "own " : "") + frame.name + (frame.tag.empty() ? "" : "@" + frame.tag);
}

std::optional<Direction> direction(const std::string& word) {
  for (const NamedDirection& named : kDirections)
    if (word == named.word) return named.direction;
  return std::nullopt;
}

std::string text(Direction direction) {
  for (const NamedDirection& named : kDirections)
    if (direction == named.direction) return named.word;
  return "";
}

Direction opposite(Direction direction) { return Direction(int(direction) ^ 1); }

int SignedPermutation::determinant() const {
  int turn = (source[1] - source[0]) * (source[2] - source[0]) * (source[2] - source[1]) / 2;
  return turn * sign[0] * sign[1] * sign[2];
}

FrameCatalogue FrameCatalogue::builtin() {
  using enum Direction;
  FrameCatalogue catalogue;
  auto add = [&](const char* name, std::array<Direction, 3> axes, const char* about) {
    FrameFacts facts{name, axes, std::nullopt, "", about, true};
    catalogue.declare(facts);
  };
  add("ned", {north, east, down}, "local level: north, east, down");
  add("enu", {east, north, up}, "local level: east, north, up");
  add("nwu", {north, west, up}, "local level: north, west, up");
  add("neu", {north, east, up}, "local level, left-handed: north, east, up");
  add("sez", {south, east, up}, "local level: south, east, up");
  add("ecef", {meridian, quarter, pole}, "fixed to the earth: 0N 0E, 0N 90E, north pole");
  add("frd", {forward, right, below}, "vehicle: forward, right, down");
  add("flu", {forward, left, above}, "vehicle: forward, left, up");
  add("camera", {right, below, forward}, "optical: right, down, forward");
  for (const char* name : {"eci", "body", "world", "map", "sensor", "imu", "lidar"}) {
    FrameFacts facts;
    facts.name = name;
    facts.builtin = true;
    facts.about = "axes not named";
    catalogue.declare(facts);
  }
  return catalogue;
}

std::optional<std::string> FrameCatalogue::declare(FrameFacts facts) {
  if (facts.name.empty()) return "a frame needs a name";
  if (facts.axes) {
    settle_vertical(*facts.axes);
    for (int i = 0; i < 3; ++i)
      for (int j = 0; j < i; ++j)
        if (line((*facts.axes)[std::size_t(i)]) == line((*facts.axes)[std::size_t(j)])) return "two axes lie along the same line";
    Hand hand = hand_of(*facts.axes);
    if (facts.hand && *facts.hand != hand)
      return std::string("its axes are ") + (hand == Hand::left ? "left" : "right") + "-handed, its hand says otherwise";
    facts.hand = hand;
  }
  if (facts.parallel_to == facts.name) return "a frame cannot be parallel to itself";
  aliases_.erase(facts.name);
  frames_[facts.name] = std::move(facts);
  return std::nullopt;
}

std::optional<std::string> FrameCatalogue::alias(const std::string& name, const std::string& of) {
  if (name == of) return "a frame cannot be an alias of itself";
  std::string at = of;
  for (int depth = 0; aliases_.contains(at); ++depth) {
    at = aliases_.at(at);
    if (at == name || depth > 100) return "the aliases go round in a circle";
  }
  frames_.erase(name);
  aliases_[name] = of;
  return std::nullopt;
}

const FrameFacts* FrameCatalogue::find(const std::string& name) const {
  auto found = frames_.find(canonical({name, "", false, false, ""}).name);
  return found == frames_.end() ? nullptr : &found->second;
}

Frame FrameCatalogue::canonical(Frame frame) const {
  for (int depth = 0; depth < 100; ++depth) {
    auto alias = aliases_.find(frame.name);
    if (alias == aliases_.end()) break;
    frame.name = alias->second;
  }
  return frame;
}

Frame FrameCatalogue::orientation(Frame frame) const {
  frame = canonical(frame);
  for (int depth = 0; depth < 100; ++depth) {
    auto found = frames_.find(frame.name);
    if (found == frames_.end() || found->second.parallel_to.empty()) break;
    frame = canonical({found->second.parallel_to, frame.tag, frame.own, false, frame.owner});
  }
  return frame;
}

std::optional<Hand> FrameCatalogue::hand(const Frame& frame) const {
  const FrameFacts* facts = find(orientation(frame).name);
  return facts ? facts->hand : std::nullopt;
}

std::optional<SignedPermutation> FrameCatalogue::map(const Frame& to, const Frame& from) const {
  Frame a = orientation(to), b = orientation(from);
  const FrameFacts *target = find(a.name), *source = find(b.name);
  if (!target || !source || !target->axes || !source->axes || a.tag != b.tag || a.own || b.own) return std::nullopt;
  SignedPermutation map;
  for (std::size_t i = 0; i < 3; ++i) {
    bool found = false;
    for (std::size_t j = 0; j < 3; ++j) {
      Direction want = (*target->axes)[i], have = (*source->axes)[j];
      if (line(want) != line(have)) continue;
      map.source[i] = int(j);
      map.sign[i] = want == have ? 1 : -1;
      found = true;
    }
    if (!found) return std::nullopt;
  }
  return map;
}

std::vector<std::string> FrameCatalogue::names() const {
  std::vector<std::string> list;
  for (const auto& [name, facts] : frames_) list.push_back(name);
  for (const auto& [name, of] : aliases_) list.push_back(name);
  std::sort(list.begin(), list.end());
  return list;
}

// A letter too many or too few is a slip; another letter is one in long names
// only: gcrs and icrs, ecl and eci are different frames.
std::optional<std::string> FrameCatalogue::nearest(const std::string& name) const {
  constexpr std::size_t kLong = 6;
  if (name.size() < 3 || std::isdigit(static_cast<unsigned char>(name.back()))) return std::nullopt;
  for (const std::string& known : names())
    if (known.size() >= 3 && edits(name, known) == 1 && (known.size() != name.size() || name.size() >= kLong)) return known;
  return std::nullopt;
}

std::optional<std::string> nearest_word(const std::string& word, const std::vector<std::string>& words) {
  std::optional<std::string> best;
  std::size_t least = 3;
  for (const std::string& candidate : words) {
    std::size_t distance = edits(word, candidate);
    if (distance >= least || distance >= std::max(word.size(), candidate.size())) continue;
    least = distance;
    best = candidate;
  }
  return best;
}

}  // namespace dextral
