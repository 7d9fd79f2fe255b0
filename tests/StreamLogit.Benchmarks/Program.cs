using System.Globalization;
using BenchmarkDotNet.Running;
using StreamLogit.Benchmarks;
using StreamLogit.Benchmarks.Kafka;
using StreamLogit.Benchmarks.Learning;
using StreamLogit.Benchmarks.Page;
using StreamLogit.Benchmarks.Ratios;

// "ratios" prints the table of speed goals, measured side by side in this run; "nightly FLIGHTS.jsonl DAYS" the log-loss of a nightly refit;
// "costs GIBIBYTES" how the cost of learning grows with slots and settings, for tables up to that size;
// "viewers NUMBER" what so many viewers of the health page cost the worker; "keys KEYS EVENTS" writes a recording of payments by that many cards;
// everything else goes to BenchmarkDotNet.
if (args is ["ratios", .. var names]) return RatioTable.Print(names);
if (args is ["nightly", var flights, var days]) return NightlyRefitOfFlights.Print(flights, int.Parse(days, CultureInfo.InvariantCulture));
if (args is ["keys", var keys, var events]) return KeyedRecording.Write(int.Parse(keys, CultureInfo.InvariantCulture), int.Parse(events, CultureInfo.InvariantCulture));
if (args is ["costs", var gibibytes]) return BankCosts.Print(double.Parse(gibibytes, CultureInfo.InvariantCulture));
if (args is ["viewers", var viewers]) return await PageViewers.PrintAsync(int.Parse(viewers, CultureInfo.InvariantCulture));
if (args is ["kafka-soak", var minutes, var eventsPerSecond]) return await KafkaSoak.RunAsync(double.Parse(minutes, CultureInfo.InvariantCulture), int.Parse(eventsPerSecond, CultureInfo.InvariantCulture));
if (args is ["mock-broker", .. var topics]) return MockBroker.Serve(topics);
BenchmarkSwitcher.FromAssembly(typeof(RatioTable).Assembly).Run(args);
return 0;
