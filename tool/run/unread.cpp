#include "run/unread.h"

#include <algorithm>
#include <iostream>

#include "run/accept.h"

namespace dextral::run {

namespace {

std::string said(const Complaint& complaint, const FileTable& files) {
  std::string line;
  if (complaint.span.valid())
    line = files.name(complaint.span.file) + ":" + std::to_string(complaint.span.begin.line) + ":" +
           std::to_string(complaint.span.begin.column) + ": ";
  return line + complaint.message;
}

std::string why(const Facts& facts) {
  std::vector<const Complaint*> complaints;
  for (const Complaint& complaint : facts.complaints)
    if (about_reading(complaint)) complaints.push_back(&complaint);
  if (complaints.empty()) return "";
  auto missing = [](const Complaint* c) { return c->kind == ComplaintKind::missing_header; };
  auto first = std::find_if(complaints.begin(), complaints.end(), missing);
  const Complaint& told = first == complaints.end() ? *complaints.front() : **first;
  std::string line = said(told, facts.files);
  if (complaints.size() > 1) line += " (and " + std::to_string(complaints.size() - 1) + " more)";
  return line;
}

}  // namespace

std::vector<Unread> unread(const std::vector<Facts>& units) {
  std::vector<Unread> list;
  for (const Facts& facts : units) {
    const std::string in_part = why(facts);
    if (!facts.read)
      list.push_back({facts.unit, true, facts.not_read_because.empty() ? in_part : facts.not_read_because});
    if (facts.read && !in_part.empty()) list.push_back({facts.unit, false, in_part});
  }
  return list;
}

std::string text(const Unread& unread) {
  return unread.unit + ": " + (unread.lost ? "not read: " : "read in part: ") + unread.why;
}

void tell_unread(const std::vector<Unread>& units) {
  for (const Unread& unit : units) std::cerr << text(unit) << "\n";
}

}  // namespace dextral::run
