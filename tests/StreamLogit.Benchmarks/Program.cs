using System.Globalization;
using BenchmarkDotNet.Running;
using StreamLogit.Benchmarks;
using StreamLogit.Benchmarks.Learning;
using StreamLogit.Benchmarks.Ratios;

// "ratios" prints the table of speed goals, measured side by side in this run; "nightly FLIGHTS.jsonl DAYS" the log-loss of a nightly refit;
// "costs GIBIBYTES" how the cost of learning grows with slots and settings, for tables up to that size;
// everything else goes to BenchmarkDotNet.
if (args is ["ratios", .. var names]) return RatioTable.Print(names);
if (args is ["nightly", var flights, var days]) return NightlyRefitOfFlights.Print(flights, int.Parse(days, CultureInfo.InvariantCulture));
if (args is ["costs", var gibibytes]) return BankCosts.Print(double.Parse(gibibytes, CultureInfo.InvariantCulture));
BenchmarkSwitcher.FromAssembly(typeof(Program).Assembly).Run(args);
return 0;
