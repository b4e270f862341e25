#include "tell/words.h"

#include <map>

#include "tell/source.h"

namespace dextral::tell {

namespace {

std::string quoted(const std::string& code) { return "`" + escaped(code) + "`"; }

std::string of_operation(const std::string& operation) {
  static const std::map<std::string, std::string> table{
      {"product", "is a product"},
      {"transpose", "is a transpose"},
      {"inverse", "is an inverse"},
      {"copy", "keeps the frames of what it is made from"},
      {"sum", "is a sum"},
      {"difference", "is a difference"},
      {"cross", "is a cross product"},
      {"dot", "is a scalar product"},
      {"skew", "is a cross-product matrix"},
      {"unskew", "is the vector of a cross-product matrix"},
      {"translation", "is the translation of a pose"},
      {"pose", "is a pose made from a rotation and a translation"},
      {"column", "is a column"},
      {"row", "is a row"},
      {"transform", "is mapped from both sides"},
      {"shuffle", "is a reordering of components"},
      {"join", "comes by several paths"},
      {"hold", "is what its phrase says"},
      {"call", "is a call"},
  };
  auto found = table.find(operation);
  return found == table.end() ? "is made by " + escaped(operation) : found->second;
}

}  // namespace

std::string words(const Reason& reason) {
  const std::string subject = quoted(reason.subject), object = quoted(reason.object);
  switch (reason.kind) {
    case ReasonKind::declared: {
      if (reason.source == dextral::Source::modelled) return subject + " is " + object + " by its library model";
      if (reason.source == dextral::Source::measured) return subject + " measures as " + object;
      if (reason.source == dextral::Source::remarked) return subject + " is remarked to be " + object;
      if (reason.source == dextral::Source::mined) return subject + " is mostly used as " + object;
      return subject + " is declared " + object;
    }
    case ReasonKind::named:
      return subject + " reads as " + object + " by its name";
    case ReasonKind::operation:
      return subject + " " + of_operation(reason.object);
    case ReasonKind::assigned:
      return subject + " is assigned to " + object;
    case ReasonKind::passed:
      return subject + " is passed as " + object;
    case ReasonKind::returned:
      return subject + " is returned from " + object;
    case ReasonKind::called:
      return subject + " calls " + object;
    case ReasonKind::read:
      return subject + " is read from " + object;
  }
  return subject;
}

std::string words(const solve::Repair& repair) {
  const std::string subject = quoted(repair.subject), other = quoted(repair.other);
  const bool unnamed = repair.other.empty();
  if (!repair.call.empty()) return "call " + quoted(repair.call) + " instead";
  switch (repair.kind) {
    case solve::RepairKind::none:
      return "";
    case solve::RepairKind::transpose:
      return unnamed ? "take the inverse of " + subject : "write " + other + " for " + subject;
    case solve::RepairKind::drop_inverse:
      return unnamed ? "take " + subject + " without the inverse" : "write " + subject + " for " + other;
    case solve::RepairKind::swap:
    case solve::RepairKind::swap_arguments:
      return "exchange " + subject + " and " + other;
    case solve::RepairKind::other_variable:
      return "take " + other + " for " + subject;
    case solve::RepairKind::twin_function:
      return "call " + other + " for " + subject;
    case solve::RepairKind::two_sided:
      return "multiply by " + (unnamed ? "the inverse of " + subject : other) + " on the right";
    case solve::RepairKind::add:
      return "add " + subject + " to " + other;
    case solve::RepairKind::subtract:
      return "subtract " + subject + " from " + other;
  }
  return "";
}

const char* name(solve::RepairKind kind) {
  switch (kind) {
    case solve::RepairKind::none:
      return "none";
    case solve::RepairKind::transpose:
      return "transpose";
    case solve::RepairKind::drop_inverse:
      return "drop inverse";
    case solve::RepairKind::swap:
      return "swap";
    case solve::RepairKind::swap_arguments:
      return "swap arguments";
    case solve::RepairKind::other_variable:
      return "other variable";
    case solve::RepairKind::twin_function:
      return "twin function";
    case solve::RepairKind::two_sided:
      return "two-sided";
    case solve::RepairKind::add:
      return "add";
    case solve::RepairKind::subtract:
      return "subtract";
  }
  return "none";
}

}  // namespace dextral::tell
