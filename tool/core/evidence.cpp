#include "core/evidence.h"

namespace dextral {

const char* text(Certainty certainty) {
  switch (certainty) {
    case Certainty::certain: return "certain";
    case Certainty::likely: return "likely";
    case Certainty::suspect: return "suspect";
  }
  return "";
}

const char* text(Source source) {
  switch (source) {
    case Source::declared: return "declared";
    case Source::modelled: return "modelled";
    case Source::measured: return "measured";
    case Source::named: return "named";
    case Source::remarked: return "remarked";
    case Source::mined: return "mined";
  }
  return "";
}

}  // namespace dextral
