// Potential and field of point charges at targets, one thread: the same sums as the service's, in
// AVX2 by hand, with square root and division. Prints million pairs a second, by CPU time and by
// the clock on the wall.
//
//     avx2 [charges] [targets] [repetitions]
#include <immintrin.h>

#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <vector>

namespace {

double seconds(clockid_t clock) {
  timespec t;
  clock_gettime(clock, &t);
  return double(t.tv_sec) + 1e-9 * double(t.tv_nsec);
}

double *aligned(size_t count) {
  return static_cast<double *>(std::aligned_alloc(64, (8 * count + 63) / 64 * 64));
}

double total(__m256d lanes) {
  alignas(32) double part[4];
  _mm256_store_pd(part, lanes);
  return (part[0] + part[1]) + (part[2] + part[3]);
}

struct Columns {
  double *x, *y, *z, *q;
};

void sumAt(const Columns &charges, size_t count, const double *target, double *out) {
  const __m256d one = _mm256_set1_pd(1), none = _mm256_setzero_pd();
  const __m256d x = _mm256_set1_pd(target[0]);
  const __m256d y = _mm256_set1_pd(target[1]);
  const __m256d z = _mm256_set1_pd(target[2]);
  __m256d v = none, ex = none, ey = none, ez = none;
  for (size_t j = 0; j < count; j += 4) {
    const __m256d dx = _mm256_sub_pd(x, _mm256_load_pd(charges.x + j));
    const __m256d dy = _mm256_sub_pd(y, _mm256_load_pd(charges.y + j));
    const __m256d dz = _mm256_sub_pd(z, _mm256_load_pd(charges.z + j));
    const __m256d square =
        _mm256_fmadd_pd(dz, dz, _mm256_fmadd_pd(dy, dy, _mm256_mul_pd(dx, dx)));
    // A charge on the target counts for nothing.
    const __m256d apart = _mm256_cmp_pd(square, none, _CMP_GT_OQ);
    const __m256d inverse = _mm256_and_pd(_mm256_div_pd(one, _mm256_sqrt_pd(square)), apart);
    const __m256d term = _mm256_mul_pd(_mm256_load_pd(charges.q + j), inverse);
    const __m256d strength = _mm256_mul_pd(term, _mm256_mul_pd(inverse, inverse));
    v = _mm256_add_pd(v, term);
    ex = _mm256_fmadd_pd(strength, dx, ex);
    ey = _mm256_fmadd_pd(strength, dy, ey);
    ez = _mm256_fmadd_pd(strength, dz, ez);
  }
  out[0] = total(v);
  out[1] = total(ex);
  out[2] = total(ey);
  out[3] = total(ez);
}

}  // namespace

int main(int argc, char **argv) {
  const size_t count = argc > 1 ? std::strtoul(argv[1], nullptr, 10) : 8000;
  const size_t targets = argc > 2 ? std::strtoul(argv[2], nullptr, 10) : 3000;
  const int repetitions = argc > 3 ? std::atoi(argv[3]) : 1;
  if (count % 4 != 0) return 2;
  const Columns charges{aligned(count), aligned(count), aligned(count), aligned(count)};
  std::vector<double> positions(3 * targets), results(4 * targets);
  std::srand(1);
  const auto random = [] { return std::rand() / double(RAND_MAX); };
  for (size_t j = 0; j < count; j++) {
    charges.x[j] = random();
    charges.y[j] = random();
    charges.z[j] = random();
    charges.q[j] = random() - 0.5;
  }
  for (double &value : positions) value = random();

  const double cpu = seconds(CLOCK_THREAD_CPUTIME_ID), wall = seconds(CLOCK_MONOTONIC);
  for (int n = 0; n < repetitions; n++) {
    for (size_t i = 0; i < targets; i++) {
      sumAt(charges, count, &positions[3 * i], &results[4 * i]);
    }
  }
  const double cpuTook = seconds(CLOCK_THREAD_CPUTIME_ID) - cpu;
  const double wallTook = seconds(CLOCK_MONOTONIC) - wall;

  // Printed, so that no compiler leaves the work out.
  double sum = 0;
  for (double value : results) sum += value;
  const double pairs = 1e-6 * double(count) * double(targets) * repetitions;
  std::printf("%.2f %.2f %g\n", pairs / cpuTook, pairs / wallTook, sum);
}
