#include "coordination/offsets/kernels.hpp"

#include <algorithm>
#include <cstring>

#if defined(__x86_64__) && defined(__GNUC__)
#include <immintrin.h>
#define ENTRAIN_WIDE_LANES 1
#endif

namespace entrain::offsets {
namespace {

// Copies b twice over, so that every rotation of it is one contiguous run.
void double_row(const Lane* b, int cycle, Lane* doubled) {
  std::memcpy(doubled, b, sizeof(Lane) * static_cast<std::size_t>(cycle));
  std::memcpy(doubled + cycle, b, sizeof(Lane) * static_cast<std::size_t>(cycle));
}

#ifdef ENTRAIN_WIDE_LANES

using Run = void (*)(const Lane* a, const int* chosen, int count, const Lane* doubled, int cycle, Lane* out);

// `vectors` registers of eight results at a time stay in the processor while the chosen a[i] go by.
template <int vectors>
__attribute__((target("avx2"))) void run_block(const Lane* a, const int* chosen, int count, const Lane* doubled, int cycle, Lane* out) {
  __m256i best[vectors];
  for (int v = 0; v < vectors; ++v) best[v] = _mm256_loadu_si256(reinterpret_cast<const __m256i*>(out + 8 * v));
  for (int c = 0; c < count; ++c) {
    const int i = chosen[c];
    const __m256i first = _mm256_set1_epi32(a[i]);
    const Lane* turned = doubled + (cycle - i);
    for (int v = 0; v < vectors; ++v)
      best[v] = _mm256_min_epi32(best[v], _mm256_add_epi32(first, _mm256_loadu_si256(reinterpret_cast<const __m256i*>(turned + 8 * v))));
  }
  for (int v = 0; v < vectors; ++v) _mm256_storeu_si256(reinterpret_cast<__m256i*>(out + 8 * v), best[v]);
}

constexpr int most_vectors = 12;
const Run runs[most_vectors + 1] = {nullptr,       run_block<1>, run_block<2>, run_block<3>,  run_block<4>,  run_block<5>, run_block<6>,
                                    run_block<7>, run_block<8>, run_block<9>, run_block<10>, run_block<11>, run_block<12>};

void run_chosen(const Lane* a, const int* chosen, int count, const Lane* doubled, int cycle, Lane* out) {
  for (int start = 0, vectors = (cycle + 7) / 8; vectors > 0; vectors -= most_vectors, start += 8 * most_vectors)
    runs[std::min(vectors, most_vectors)](a, chosen, count, doubled + start, cycle, out + start);
}

__attribute__((target("avx2"))) Lane greatest_wide(const Lane* row, int cycle) {
  __m256i most = _mm256_set1_epi32(INT32_MIN);
  int k = 0;
  for (; k + 8 <= cycle; k += 8) most = _mm256_max_epi32(most, _mm256_loadu_si256(reinterpret_cast<const __m256i*>(row + k)));
  alignas(32) Lane lanes[8];
  _mm256_store_si256(reinterpret_cast<__m256i*>(lanes), most);
  Lane greatest = *std::max_element(lanes, lanes + 8);
  for (; k < cycle; ++k) greatest = std::max(greatest, row[k]);
  return greatest;
}

__attribute__((target("avx2"))) Lane least_wide(const Lane* row, int cycle) {
  __m256i least = _mm256_set1_epi32(INT32_MAX);
  int k = 0;
  for (; k + 8 <= cycle; k += 8) least = _mm256_min_epi32(least, _mm256_loadu_si256(reinterpret_cast<const __m256i*>(row + k)));
  alignas(32) Lane lanes[8];
  _mm256_store_si256(reinterpret_cast<__m256i*>(lanes), least);
  Lane found = *std::min_element(lanes, lanes + 8);
  for (; k < cycle; ++k) found = std::min(found, row[k]);
  return found;
}

// Only those a[i] that can still lower something take part: after the smallest a[i] no result lies above `ceiling`.
void convolve_wide(const Lane* a, const Lane* b, int cycle, Lane* out, ConvolutionSpace& space) {
  double_row(b, cycle, space.doubled());
  int* chosen = space.chosen();
  const Lane least_a = least_wide(a, cycle), least_b = least_wide(b, cycle);
  chosen[0] = static_cast<int>(std::find(a, a + cycle, least_a) - a);
  const int first = chosen[0];
  run_chosen(a, chosen, 1, space.doubled(), cycle, out);
  const Lane ceiling = greatest_wide(out, cycle) - least_b;
  int count = 0;
  for (int i = 0; i < cycle; ++i) {
    chosen[count] = i;
    count += static_cast<int>(a[i] < ceiling) & static_cast<int>(i != first);
  }
  run_chosen(a, chosen, count, space.doubled(), cycle, out);
}

bool has_wide_lanes() {
  static const bool known = __builtin_cpu_supports("avx2") != 0;
  return known;
}
#endif

}  // namespace

void convolve_into_plainly(const Lane* a, const Lane* b, int cycle, Lane* out) {
  for (int i = 0; i < cycle; ++i) {
    for (int k = 0; k < i; ++k) out[k] = std::min(out[k], a[i] + b[k - i + cycle]);
    for (int k = i; k < cycle; ++k) out[k] = std::min(out[k], a[i] + b[k - i]);
  }
}

void convolve_into(const Lane* a, const Lane* b, int cycle, Lane* out, ConvolutionSpace& space) {
#ifdef ENTRAIN_WIDE_LANES
  if (has_wide_lanes()) return convolve_wide(a, b, cycle, out, space);
#endif
  static_cast<void>(space);
  convolve_into_plainly(a, b, cycle, out);
}

void reverse_row(const Lane* in, int cycle, Lane* out) {
  out[0] = in[0];
  std::reverse_copy(in + 1, in + cycle, out + 1);
}

Lane least_of(const Lane* row, int cycle) {
#ifdef ENTRAIN_WIDE_LANES
  if (has_wide_lanes()) return least_wide(row, cycle);
#endif
  return *std::min_element(row, row + cycle);
}

}  // namespace entrain::offsets
