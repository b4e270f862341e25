// Frames: names, tags, axes, and what is known about each of them.
//
// A frame is a set of three axes with an origin. `body@k` is the same kind of
// frame as `body` at another time, place or belief: a different frame. `own
// body` on a field is the frame of the object that holds the field. `?A` is a
// variable of a generic contract.
//
// The catalogue knows the built-in frames and those that a project declares.
// Limits: an axis points along one of eighteen named directions; a frame
// without named axes has none, and no constant map to another.
#pragma once

#include <array>
#include <compare>
#include <map>
#include <optional>
#include <string>
#include <vector>

namespace dextral {

struct Frame {
  std::string name;       // "ned"; empty: no frame
  std::string tag;        // "k" in body@k
  bool own = false;       // belongs to the object that holds the field
  bool variable = false;  // ?A
  std::string owner;      // for own frames in use: the object's access path
  bool known() const { return !name.empty(); }
  auto operator<=>(const Frame&) const = default;
};

// "body@k", "own body", "?A".
std::string text(const Frame&);

// A direction of an axis. Opposite directions differ in the last bit.
enum class Direction {
  north, south, east, west, down, up,
  forward, aft, right, left, below, above,
  meridian, antimeridian, quarter, antiquarter, pole, antipole,
};

std::optional<Direction> direction(const std::string& word);
std::string text(Direction);
Direction opposite(Direction);

enum class Hand { right, left };

struct FrameFacts {
  std::string name;
  std::optional<std::array<Direction, 3>> axes;
  std::optional<Hand> hand;  // where axes are not named
  std::string parallel_to;   // same axes, other origin
  std::string about;         // one line for people
  bool builtin = false;
};

// A constant map between two frames with named axes: component i of the
// result is sign[i] times component source[i].
struct SignedPermutation {
  std::array<int, 3> source{0, 1, 2};
  std::array<int, 3> sign{1, 1, 1};
  int determinant() const;
  bool operator==(const SignedPermutation&) const = default;
};

class FrameCatalogue {
 public:
  static FrameCatalogue builtin();

  // Adds or replaces. Returns what is wrong with it, or nothing.
  std::optional<std::string> declare(FrameFacts);
  std::optional<std::string> alias(const std::string& name, const std::string& of);

  const FrameFacts* find(const std::string& name) const;
  // The frame under its principal name: aliases resolved.
  Frame canonical(Frame) const;
  // The frame whose axes it has: aliases and `parallel to` resolved.
  Frame orientation(Frame) const;
  std::optional<Hand> hand(const Frame&) const;
  // The map that takes components in `from` to components in `to`.
  std::optional<SignedPermutation> map(const Frame& to, const Frame& from) const;
  // The declared or built-in name that it is a slip of, or none.
  std::optional<std::string> nearest(const std::string& name) const;
  std::vector<std::string> names() const;

 private:
  std::map<std::string, FrameFacts> frames_;
  std::map<std::string, std::string> aliases_;
};

// The word of `words` nearest to `word` within two edits, or none.
std::optional<std::string> nearest_word(const std::string& word, const std::vector<std::string>& words);

}  // namespace dextral
