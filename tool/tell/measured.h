// What functions were measured as, in words and for programs.
//
// In words: what the function is, its formula, how surely (points, worst
// disagreement, steps), and one line of numbers to check by hand. In a table
// each function has one line. JSON is our own stable shape, like that of
// findings.
#pragma once

#include <string>
#include <vector>

#include "core/measured.h"
#include "tell/report.h"

namespace dextral::tell {

// By file, place, name and selected values.
void sort(std::vector<Measurement>&, const FileTable&);

std::string text(const std::vector<Measurement>&, const FileTable&, const Style&);
std::string table(const std::vector<Measurement>&, const FileTable&, const Style&);
std::string json(const std::vector<Measurement>&, const FileTable&, const Style&);

}  // namespace dextral::tell
