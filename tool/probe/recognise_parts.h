// Parts of recognition: how groups of numbers are read as things, and the
// points at which a candidate is run.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "probe/catalogue.h"
#include "probe/recognise.h"

namespace dextral::probe {

// Some of the flat numbers, in the order of the entry's reading.
struct Thing {
  std::vector<int> at;
  bool partial = false;  // numbers of a group are left over that are in use
  bool flat = false;     // a matrix of unknown storage: read by rows
};

using Things = std::vector<Thing>;

// Every way to read the groups as things; the plainest first. `live` marks the
// numbers that matter: inputs that the function depends on, outputs that vary.
std::vector<Things> readings(const std::vector<Group>&, const std::vector<bool>& live);

// The same reading with each flat matrix read by columns.
Things by_columns(Things);
bool any_flat(const Things&);

Named named(const std::vector<Group>&, const Thing&, bool output);

// Where the inputs of the points lie.
enum class Domain {
  general,   // any numbers
  rotation,  // matrices are rotations, quaternions are unit; vectors any
  axis,      // vectors are unit too
  blend,     // single numbers lie between 0 and 1
};

class Points {
 public:
  Points(const Signature&, const Run&);

  // The k-th point of a domain at which the candidate runs, or nothing.
  const Trial* at(Domain, const Things& inputs, std::size_t k);
  // Fresh inputs without a run.
  Numbers draw(Domain, const Things& inputs, std::uint64_t seed) const;
  std::optional<Numbers> run(const Numbers&);

  std::size_t runs() const { return runs_; }
  const std::string& refusal() const { return refusal_; }
  std::vector<Trial> trials() const;

 private:
  struct Series {
    std::vector<Trial> trials;
    std::size_t drawn = 0, failed = 0;
  };
  const Signature& signature_;
  const Run& run_;
  std::map<std::pair<Domain, std::vector<std::vector<int>>>, Series> series_;
  std::size_t runs_ = 0;
  std::string refusal_;
  std::size_t inputs_ = 0, outputs_ = 0;
};

std::size_t count(const std::vector<Group>&);

}  // namespace dextral::probe
