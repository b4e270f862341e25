// Candidates of tests: a signature in few words and a plain function.
#pragma once

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <functional>
#include <string>
#include <vector>

#include "phrase/phrase.h"
#include "probe/catalogue_numbers.h"
#include "probe/recognise.h"

namespace dextral::probe {

inline Group group(const std::string& formal, std::size_t count, bool square = true) {
  std::size_t side = !square ? 0 : count == 9 ? 3 : count == 16 ? 4 : 0;
  return {.formal = formal, .text = formal, .count = count, .rows = side, .columns = side};
}

inline Signature signature(std::vector<std::size_t> in, std::vector<std::size_t> out, bool square = true) {
  Signature s;
  for (std::size_t i = 0; i < in.size(); ++i) s.inputs.push_back(group("p" + std::to_string(i), in[i], square));
  for (std::size_t i = 0; i < out.size(); ++i)
    s.outputs.push_back(group(out.size() == 1 ? "return" : "o" + std::to_string(i), out[i], square));
  return s;
}

using Plain = std::function<Numbers(const Numbers&)>;

inline Measurement measured(const Signature& s, const Plain& f) {
  return recognise(s, [&](const Numbers& x) -> std::variant<Numbers, Refusal> { return f(x); });
}

// As if computed in single precision: every result is off by some 1e-6.
inline Measurement measured_single(Signature s, const Plain& f) {
  s.single_precision = true;
  return measured(s, [&](const Numbers& x) {
    Numbers y = f(x);
    for (std::size_t i = 0; i < y.size(); ++i)
      y[i] = static_cast<float>(y[i] * (1 + 1e-6 * std::sin(double(i) + y[i] * 1e3)));
    return y;
  });
}

inline std::string told(const Measurement& m) {
  std::string text = m.refusal;
  for (const Meaning& x : m.meanings) text += (text.empty() ? "" : " | ") + x.id;
  return text.empty() ? "nothing" : text;
}

inline std::string words(const Measurement& m) { return m.meanings.empty() ? "" : m.meanings[0].words; }

inline std::string contract(const Measurement& m) {
  std::string text;
  if (m.meanings.empty()) return text;
  for (const Term& t : m.meanings[0].contract)
    text += (text.empty() ? "" : "; ") + t.formal + ": " + phrase::print(t.quantity);
  return text;
}

template <std::size_t N>
Numbers numbers(const std::array<double, N>& a) {
  return {a.begin(), a.end()};
}

}  // namespace dextral::probe
