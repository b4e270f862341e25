// Worker processes: each translation unit is read in a process of its own kind,
// so that one that crashes, hangs or outgrows its memory costs itself only.
//
// The parent forks the workers and hands out units one at a time over a socket;
// a worker answers with encoded facts. A worker that dies, passes its time or
// its memory is replaced, and the facts of its unit say in plain words why it
// was not read. Results stand in the order of the units, so that the number of
// workers changes no byte of the output. No code of the project under study
// runs here; it is only parsed.
#pragma once

#include <cstddef>
#include <functional>
#include <vector>

#include "core/facts.h"
#include "project/project.h"

namespace dextral::run {

struct Limits {
  std::size_t workers = 0;       // 0: one for each core, as far as memory goes
  double seconds = 120;          // for one unit
  std::size_t megabytes = 4096;  // for one unit
  bool progress = true;          // a line on the terminal while it takes long
  bool in_process = false;       // for debuggers: no workers, no limits
};

using ReadUnit = std::function<Facts(const project::Unit&)>;

std::vector<Facts> read_all(const std::vector<project::Unit>&, const ReadUnit&, const Limits&);

// One for each core, but no more than the free memory carries.
std::size_t default_workers();

// More stack for deeply nested code; for this process and what it forks.
void raise_stack();

}  // namespace dextral::run
