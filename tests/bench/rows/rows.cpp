// The listing loop of the row engine in C++, plainly: the same classes, order of columns, ranges and cuts as
// packages/search/src/listing.ts, for norms that fit. Reads rank, n, Gram matrix and order from standard input; prints nodes, orbits.
#include <cmath>
#include <cstdio>
#include <cstdint>
#include <vector>
using std::vector;

struct Columns {
  vector<int> mult, start{0}, rows;
  vector<double> vals;
  int zeros = 0;
  int count() const { return (int)mult.size(); }
  void reset(int z) { mult.clear(); start.assign(1, 0); rows.clear(); vals.clear(); zeros = z; }
};

static int rank_, n_;
static vector<vector<double>> target;
static vector<double> norms;
static int64_t nodes = 0, orbits = 0;
static vector<Columns> level;

static void enter(int depth);

struct Listing {
  int depth; Columns &c; vector<int> slotClass; vector<double> val, b, s; int unmet = 0;
  vector<double> squares;
  Listing(int d) : depth(d), c(level[d]), b(target[d]), s(norms.begin(), norms.begin() + d) {
    for (double x : b) if (x != 0) unmet++;
    arrange();
    val.assign(slotClass.size() + 1, 0);
  }
  void arrange() {
    int k = c.count(); vector<char> taken(k, 0), queued(depth, 0); vector<double> open(depth, 0); vector<vector<int>> users(depth); vector<int> queue;
    for (int i = 0; i < k; i++) for (int e = c.start[i]; e < c.start[i + 1]; e++) { open[c.rows[e]] += c.mult[i]; users[c.rows[e]].push_back(i); }
    for (int i = depth - 1; i >= 0; i--) if (b[i] != 0) { queued[i] = 1; queue.push_back(i); }
    int filled = 0, next = depth - 1;
    while (filled < k) {
      while (queue.empty()) { if (!queued[next]) { queued[next] = 1; queue.push_back(next); } next--; }
      size_t best = 0; for (size_t q = 1; q < queue.size(); q++) if (open[queue[q]] < open[queue[best]]) best = q;
      int row = queue[best]; queue.erase(queue.begin() + best);
      for (int cl : users[row]) { if (taken[cl]) continue; taken[cl] = 1; filled++; for (int m = 0; m < c.mult[cl]; m++) slotClass.push_back(cl);
        for (int e = c.start[cl]; e < c.start[cl + 1]; e++) { int o = c.rows[e]; open[o] -= c.mult[cl]; if (!queued[o]) { queued[o] = 1; queue.push_back(o); } } }
    }
  }
  void child(int pos) {
    nodes++;
    if (depth + 1 == rank_) { orbits++; return; }
    Columns &to = level[depth + 1]; to.reset(c.zeros - (int)squares.size());
    auto add = [&](int cl, double v, int m) {
      if (cl >= 0) for (int e = c.start[cl]; e < c.start[cl + 1]; e++) { to.rows.push_back(c.rows[e]); to.vals.push_back(c.vals[e]); }
      if (v != 0) { to.rows.push_back(depth); to.vals.push_back(v); }
      to.mult.push_back(m); to.start.push_back((int)to.rows.size());
    };
    for (size_t i = 0; i < slotClass.size();) { double v = (int)i < pos ? val[i] : 0; size_t j = i + 1; while (j < slotClass.size() && slotClass[j] == slotClass[i] && ((int)j < pos ? val[j] : 0) == v) j++; add(slotClass[i], v, (int)(j - i)); i = j; }
    for (size_t i = 0; i < squares.size();) { size_t j = i + 1; while (j < squares.size() && squares[j] == squares[i]) j++; add(-1, squares[i], (int)(j - i)); i = j; }
    enter(depth + 1);
  }
  void sums(double r, int slots, double most, int pos) {
    if (r == 0) { child(pos); return; }
    if (slots == 0) return;
    double x = std::floor(std::sqrt(r)); if (most < x) x = most;
    for (; x >= 1 && x * x * slots >= r; x--) {
      double rest = r - x * x;
      if (slots == 1 && rest != 0) break;
      if (slots == 2 && rest != 0) { double y = std::floor(std::sqrt(rest)); if (y * y != rest) continue; }
      squares.push_back(x); sums(rest, slots - 1, x, pos); squares.pop_back();
    }
  }
  void fill(int pos, double r) {
    if (pos == (int)slotClass.size() || r == 0) {
      if (unmet) return;
      if (pos > 0 && pos < (int)slotClass.size() && slotClass[pos] == slotClass[pos - 1] && val[pos - 1] < 0) return;
      sums(r, c.zeros, 1e9, pos); return;
    }
    int cl = slotClass[pos]; double high = std::floor(std::sqrt(r) + 1e-6), low = -high;
    if (pos > 0 && slotClass[pos - 1] == cl && val[pos - 1] < high) high = val[pos - 1];
    for (int e = c.start[cl]; e < c.start[cl + 1]; e++) {
      int i = c.rows[e]; double p = c.vals[e], whole = s[i], inside = r * whole - b[i] * b[i];
      if (inside < 0) return;
      double spread = std::sqrt((whole - p * p) * inside) / whole + 1e-6, middle = b[i] * p / whole;
      double top = std::floor(middle + spread), bottom = std::ceil(middle - spread);
      if (top < high) high = top; if (bottom > low) low = bottom;
    }
    for (double v = high; v >= low; v--) {
      double rest = r - v * v; if (rest < 0) continue;
      bool ok = true;
      for (int e = c.start[cl]; e < c.start[cl + 1] && ok; e++) { double p = c.vals[e]; if (s[c.rows[e]] == p * p && b[c.rows[e]] != p * v) ok = false; }
      if (!ok) continue;
      for (int e = c.start[cl]; e < c.start[cl + 1]; e++) { int i = c.rows[e]; double p = c.vals[e]; s[i] -= p * p; if (v != 0) { double o = b[i]; b[i] = o - p * v; if (o == 0) unmet++; else if (b[i] == 0) unmet--; } }
      val[pos] = v; fill(pos + 1, rest);
      for (int e = c.start[cl]; e < c.start[cl + 1]; e++) { int i = c.rows[e]; double p = c.vals[e]; s[i] += p * p; if (v != 0) { double o = b[i]; b[i] = o + p * v; if (o == 0) unmet++; else if (b[i] == 0) unmet--; } }
    }
  }
};

static void enter(int depth) { Listing l(depth); l.fill(0, norms[depth]); }

int main() {
  if (scanf("%d %d", &rank_, &n_) != 2) return 1;
  vector<vector<double>> g(rank_, vector<double>(rank_)); for (auto &row : g) for (auto &x : row) if (scanf("%lf", &x) != 1) return 1;
  for (int i = 0; i < rank_; i++) { norms.push_back(g[i][i]); target.push_back(vector<double>(g[i].begin(), g[i].begin() + i)); }
  level.resize(rank_ + 1); level[0].reset(n_); nodes = 1; enter(0);
  printf("%lld %lld\n", (long long)nodes, (long long)orbits);
}
