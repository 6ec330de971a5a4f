% The work of bw_hazard_many in GNU Octave, vectorised: icnirp-2013, a point source, 400 to 1400 nm, Gaussian beams.
%
% usage: octave-cli bench_octave.m PAIRS RESULTS TIMES
% Reads the pairs of wavelength and time that bench_beamward wrote, does the same work, compares the answers, and adds
% its times. Written for speed, as bench_numpy.py.
1;

function y = power_of_ten(x)
  y = 2 .^ (3.321928094887362 * x);
end

function e = thermal(w, t)
  infrared = w >= 1050;
  ca = power_of_ten(0.002 * min(max(w - 700, 0), 350));
  ca(infrared) = 5;
  cc = ones(size(w));
  cc(infrared) = power_of_ten(0.018 * min(max(w(infrared) - 1150, 0), 50));
  beyond = w >= 1200;
  cc(beyond) = 8 + power_of_ten(0.04 * (w(beyond) - 1250));
  rising = 18 * ca;
  rising(infrared) = 90 * cc(infrared);
  rising ./= sqrt(sqrt(t));
  short = 2e-3 * ca;
  short(infrared) = 2e-2 * cc(infrared);
  short ./= t;
  edge = repmat(5e-6, size(w));
  edge(infrared) = 1.3e-5;
  e = merge(t < edge, short, rising);
  long = t >= 10;
  e(long) = 10 * ca(long) .* cc(long);
end

function e = photochemical(w, t)
  cb = power_of_ten(0.02 * max(w - 450, 0));
  e = merge(t < 100, 100 * cb ./ t, cb);
end

function [e, aperture] = anterior(w, t)
  root = sqrt(t);
  quarter = sqrt(root);
  e = merge(t < 1e-7, 200 * 5 ./ t, 1.1e4 * 5 ./ (root .* quarter));
  e(t >= 10) = 2000 * 5;
  mm = 1.5 * quarter .* sqrt(quarter);
  mm(t < 0.35) = 1;
  mm(t >= 10) = 3.5;
  aperture = mm * 1e-3;
end

function [reach, ratio] = hazard(e, aperture)
  power_w = 5; diameter_m = 3e-3; divergence_rad = 0.02;
  q = e .* (pi / 4 * aperture .^ 2 / power_w);
  edge = aperture .^ 2 ./ -log1p(-min(q, 1));
  reach = max(edge - diameter_m ^ 2, 0) / divergence_rad ^ 2;
  ratio = -expm1(-(aperture / diameter_m) .^ 2) ./ q;
end

function [limit, distance, density] = work(w, t)
  e = thermal(w, t);
  [reach, ratio] = hazard(e, 7e-3);
  blue = find(w <= 600 & t >= 10);
  other = photochemical(w(blue), t(blue));
  [other_reach, other_ratio] = hazard(other, 7e-3);
  e(blue) = min(e(blue), other);
  reach(blue) = max(reach(blue), other_reach);
  ratio(blue) = max(ratio(blue), other_ratio);
  front = find(w >= 1250);
  [other, aperture] = anterior(w(front), t(front));
  [other_reach, other_ratio] = hazard(other, aperture);
  e(front) = min(e(front), other);
  reach(front) = max(reach(front), other_reach);
  ratio(front) = max(ratio(front), other_ratio);
  limit = e .* t;
  distance = sqrt(reach);
  density = log10(max(ratio, 1));
end

function got = all_work(w, t)
  block = 40000;
  got = zeros(numel(w), 3);
  for i = 1:block:numel(w)
    at = i:min(i + block - 1, numel(w));
    [got(at, 1), got(at, 2), got(at, 3)] = work(w(at), t(at));
  end
end

function numbers = read(path, columns)
  file = fopen(path, "rb");
  numbers = reshape(fread(file, Inf, "double"), [], columns);
  fclose(file);
end

runs = 15;
paths = argv();
pairs = read(paths{1}, 2);
want = read(paths{2}, 3);
w = pairs(:, 1);
t = pairs(:, 2);
times = zeros(1, runs);
for run = 1:runs
  start = cputime();
  got = all_work(w, t);
  times(run) = cputime() - start;
end
file = fopen(paths{3}, "a");
fprintf(file, "GNU Octave %s;%.9g;%.9g\n", version(), min(times), median(times));
fclose(file);
off = max(abs(got - want) ./ max(abs(want), 1));
printf("GNU Octave differs by at most %.1e (limit), %.1e (distance), %.1e (density)\n", off);
if !(max(off) <= 1e-9)
  error("the answers differ");
end
