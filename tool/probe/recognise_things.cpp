// Readings of groups: a group whole; cut in two; its live numbers alone where
// the others are padding; neighbours taken together.
#include <algorithm>
#include <set>

#include "probe/recognise_parts.h"

namespace dextral::probe {

namespace {

constexpr std::size_t kMostReadings = 60;
const std::set<std::size_t> kSizes = {1, 3, 4, 9, 12, 16};

class Reader {
 public:
  Reader(const std::vector<Group>& groups, const std::vector<bool>& live) : live_(live) {
    int at = 0;
    for (const Group& g : groups) {
      int from = at;
      at += int(g.count);
      if (std::any_of(live.begin() + from, live.begin() + at, [](bool b) { return b; })) used_.push_back({&g, from});
    }
  }

  std::vector<Things> all() {
    read(0, {});
    std::stable_sort(found_.begin(), found_.end(), [](auto& a, auto& b) { return a.first < b.first; });
    std::vector<Things> list;
    for (auto& [cost, things] : found_) list.push_back(std::move(things));
    return list;
  }

 private:
  struct Used {
    const Group* group;
    int from;
  };

  static std::vector<int> run(int from, std::size_t n) {
    std::vector<int> at(n);
    for (std::size_t i = 0; i < n; ++i) at[i] = from + int(i);
    return at;
  }

  static Thing whole(const Used& u) {
    const Group& g = *u.group;
    Thing t{.at = run(u.from, g.count)};
    std::size_t side = g.count == 9 ? 3 : g.count == 16 ? 4 : 0;
    if (!side) return t;
    if (g.rows == 0) t.flat = true;
    if (g.rows && g.column_major) t = by_columns({{.at = t.at, .flat = true}})[0], t.flat = false;
    return t;
  }

  std::vector<int> alive(const Used& u) const {
    std::vector<int> at;
    for (int i : run(u.from, u.group->count))
      if (live_[i]) at.push_back(i);
    return at;
  }

  void read(std::size_t k, Things so_far, int cost = 0) {
    if (found_.size() >= kMostReadings) return;
    if (k == used_.size()) return found_.push_back({cost, so_far}), void();
    auto go = [&](std::size_t next, std::vector<Thing> more, int extra) {
      Things things = so_far;
      things.insert(things.end(), more.begin(), more.end());
      read(next, std::move(things), cost + extra);
    };
    const Used& u = used_[k];
    if (kSizes.contains(u.group->count)) go(k + 1, {whole(u)}, 0);
    compressed(u, [&](std::vector<Thing> t) { go(k + 1, std::move(t), 1); });
    cut(u, [&](std::vector<Thing> t) { go(k + 1, std::move(t), 2); });
    together(k, [&](std::size_t next, Thing t) { go(next, {t}, 1); });
  }

  template <typename Then>
  void compressed(const Used& u, Then then) {
    std::vector<int> at = alive(u);
    std::size_t n = u.group->count;
    if (at.size() == n) return;
    if (n == 4 && at.size() == 3) return then({{.at = at}});
    if (at.size() < 3 && n <= 4) {
      std::vector<Thing> singles;
      for (int i : at) singles.push_back({.at = {i}, .partial = true});
      return then(singles);
    }
    if (n == 12 || n == 16) upper(u, at, then);
  }

  // The 3x3 of a padded or homogeneous matrix.
  template <typename Then>
  void upper(const Used& u, const std::vector<int>& at, Then then) {
    Used square = u;
    std::vector<int> nine;
    for (int i = 0; i < 3; ++i)
      for (int j = 0; j < 3; ++j) nine.push_back(u.from + 4 * i + j);
    if (!std::includes(nine.begin(), nine.end(), at.begin(), at.end())) return;
    Thing t{.at = nine, .flat = u.group->rows == 0};
    if (square.group->column_major) t = by_columns({{.at = nine, .flat = true}})[0], t.flat = false;
    then({t});
  }

  template <typename Then>
  void cut(const Used& u, Then then) {
    static const std::vector<std::pair<std::size_t, std::size_t>> cuts = {{3, 1}, {1, 3}, {3, 3}, {4, 3}, {3, 4},
                                                                          {4, 4}, {9, 3}, {3, 9}, {9, 9}};
    for (auto [a, b] : cuts)
      if (a + b == u.group->count && u.group->rows == 0)
        then({{.at = run(u.from, a), .partial = true, .flat = a == 9},
              {.at = run(u.from + int(a), b), .partial = true, .flat = b == 9}});
  }

  template <typename Then>
  void together(std::size_t k, Then then) {
    Thing t;
    for (std::size_t j = k; j < used_.size(); ++j) {
      Thing next = whole(used_[j]);
      t.at.insert(t.at.end(), next.at.begin(), next.at.end());
      std::size_t n = t.at.size();
      if (n > 12) return;
      if (j == k) continue;
      bool triples = n == 9 && used_[k].group->count == 3;
      bool singles = used_[k].group->count == 1;
      if (n == 3 || n == 4 || (n == 9 && (singles || triples))) then(j + 1, t);
      if (n == 12) pose(k, j, then);
    }
  }

  // A 3x3 and a vector as the rows of [R t].
  template <typename Then>
  void pose(std::size_t k, std::size_t j, Then then) {
    if (j != k + 1) return;
    Thing a = whole(used_[k]), b = whole(used_[j]);
    if (a.at.size() != 9) std::swap(a, b);
    if (a.at.size() != 9 || b.at.size() != 3) return;
    Thing t;
    for (int i = 0; i < 3; ++i) {
      for (int c = 0; c < 3; ++c) t.at.push_back(a.at[3 * i + c]);
      t.at.push_back(b.at[i]);
    }
    then(j + 1, t);
  }

  const std::vector<bool>& live_;
  std::vector<Used> used_;
  std::vector<std::pair<int, Things>> found_;
};

std::string part(const Group& g, int i) { return g.count == 1 ? g.text : g.text + "[" + std::to_string(i) + "]"; }

}  // namespace

std::vector<Things> readings(const std::vector<Group>& groups, const std::vector<bool>& live) {
  return Reader(groups, live).all();
}

Things by_columns(Things things) {
  for (Thing& t : things) {
    std::size_t side = t.at.size() == 9 ? 3 : t.at.size() == 16 ? 4 : 0;
    if (!t.flat || !side) continue;
    std::vector<int> at = t.at;
    for (std::size_t i = 0; i < at.size(); ++i) t.at[i] = at[side * (i % side) + i / side];
  }
  return things;
}

bool any_flat(const Things& things) {
  return std::any_of(things.begin(), things.end(), [](const Thing& t) { return t.flat; });
}

Named named(const std::vector<Group>& groups, const Thing& thing, bool output) {
  Named n{.output = output, .partial = thing.partial};
  std::vector<std::string> texts;
  for (int at : thing.at) {
    int from = 0;
    for (const Group& g : groups) {
      if (at < from + int(g.count)) {
        n.parts.push_back(part(g, at - from));
        if (std::find(n.formals.begin(), n.formals.end(), g.formal) == n.formals.end()) {
          n.formals.push_back(g.formal);
          texts.push_back(g.text);
        }
        break;
      }
      from += int(g.count);
    }
  }
  if (thing.at.size() == 1)
    n.text = n.parts[0];
  else if (texts.size() == 1 && !thing.partial)
    n.text = texts[0];
  else if (texts.size() == 1)
    n.text = n.parts.front() + ".." + n.parts.back();
  else {
    for (const std::string& t : texts) n.text += (n.text.empty() ? "(" : ", ") + t;
    n.text += ")";
  }
  return n;
}

}  // namespace dextral::probe
