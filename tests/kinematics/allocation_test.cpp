// Counts every allocation of this test program. Eigen allocates by malloc and not by operator new, so malloc
// itself is replaced (glibc lets a program do that); operator new comes through it too.
#include <cstddef>
#include <cstdlib>

#include <doctest/doctest.h>

#include "pathvet/kinematics/chain.hpp"
#include "support/random_arm.hpp"

#if defined(__SANITIZE_ADDRESS__)
#define PATHVET_COUNTS_ALLOCATIONS 0  // the sanitizer replaces malloc itself
#elif defined(__has_feature)
#if __has_feature(address_sanitizer) || __has_feature(memory_sanitizer) || __has_feature(thread_sanitizer)
#define PATHVET_COUNTS_ALLOCATIONS 0
#endif
#endif
#if !defined(PATHVET_COUNTS_ALLOCATIONS) && defined(__GLIBC__)
#define PATHVET_COUNTS_ALLOCATIONS 1
#endif

#if PATHVET_COUNTS_ALLOCATIONS

namespace {
thread_local long allocations = 0;
}  // namespace

extern "C" void* __libc_malloc(std::size_t size);

extern "C" void* malloc(std::size_t size) noexcept {
  ++allocations;
  return __libc_malloc(size);
}

namespace pathvet {
namespace {

template <int N>
long allocations_of_one_sample(const Chain& chain, const JointColumn<N>& q) {
  ChainState<N> state;
  JacobianMatrix<N> jacobian;
  const long before = allocations;
  chain.evaluate<N>(q, state);
  chain.jacobian<N>(state, jacobian);
  chain.scaled_jacobian<N>(state, jacobian);
  const Vector6 bias = chain.bias<N>(state, q);
  const long after = allocations;
  CHECK(bias.allFinite());
  return after - before;
}

TEST_CASE("the counter sees an allocation of Eigen and one of operator new") {
  const long before = allocations;
  Eigen::MatrixXd matrix = Eigen::MatrixXd::Random(20, 20);
  const long after_eigen = allocations;
  std::vector<double> values(100, matrix(0, 0));
  const long after_vector = allocations;
  CHECK(values[99] == matrix(0, 0));
  CHECK(after_eigen > before);
  CHECK(after_vector > after_eigen);
}

TEST_CASE("forward map, Jacobian and bias allocate nothing") {
  test::Random random("allocations");
  for (int joints = 1; joints <= max_joints; ++joints) {
    const test::LinkArm links = test::random_link_arm(random, joints);
    const Chain chain(test::to_arm(links), links.tool);
    const JointVector q = test::random_joints(random, links);
    CAPTURE(joints);
    CHECK(allocations_of_one_sample<Eigen::Dynamic>(chain, q) == 0);
    if (joints == 6) CHECK(allocations_of_one_sample<6>(chain, JointColumn<6>(q)) == 0);
  }
}

}  // namespace
}  // namespace pathvet

#endif
