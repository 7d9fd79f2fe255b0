using BenchmarkDotNet.Running;
using StreamLogit.Benchmarks.Ratios;

// "ratios" prints the table of speed goals, measured side by side in this run; everything else goes to BenchmarkDotNet.
if (args is ["ratios", .. var names]) return RatioTable.Print(names);
BenchmarkSwitcher.FromAssembly(typeof(Program).Assembly).Run(args);
return 0;
