using System.Diagnostics;
using System.Globalization;
using StreamLogit.Kafka.Tests.MockCluster;

namespace StreamLogit.Benchmarks.Kafka;

/// <summary>The client library's mock cluster in a process of its own, so that its work is not counted as the worker's.</summary>
internal sealed class MockBroker : IDisposable
{
    /// <summary>How many brokers it has, numbered from 1.</summary>
    public const int Brokers = 2;

    private readonly Process _process;

    private MockBroker(Process process, string servers)
    {
        _process = process;
        Servers = servers;
    }

    /// <summary>Where it listens.</summary>
    public string Servers { get; }

    /// <summary>Runs it in this process until standard input ends.</summary>
    /// <param name="topics">The topics, as <c>name:partitions</c>.</param>
    public static int Serve(IEnumerable<string> topics)
    {
        using var cluster = new KafkaMock(Brokers);
        foreach (string topic in topics)
        {
            string[] parts = topic.Split(':');
            cluster.CreateTopic(parts[0], int.Parse(parts[1], CultureInfo.InvariantCulture));
        }
        Console.Out.WriteLine(cluster.Servers);
        while (Console.In.ReadLine() is { } command) Obey(cluster, command.Split(' '));
        return 0;
    }

    /// <summary>Has something happen to it: <c>away</c>, <c>back</c>, <c>slow MILLISECONDS</c>, <c>coordinator GROUP BROKER</c> or <c>leader TOPIC BROKER</c>.</summary>
    public void Do(string command) => _process.StandardInput.WriteLine(command);

    /// <summary>Starts it in a process of its own.</summary>
    public static MockBroker Start(params string[] topics)
    {
        var start = new ProcessStartInfo(Environment.ProcessPath!) { RedirectStandardInput = true, RedirectStandardOutput = true };
        if (Path.GetFileNameWithoutExtension(Environment.ProcessPath) == "dotnet") start.ArgumentList.Add(typeof(MockBroker).Assembly.Location);
        start.ArgumentList.Add("mock-broker");
        foreach (string topic in topics) start.ArgumentList.Add(topic);
        var process = Process.Start(start)!;
        string servers = process.StandardOutput.ReadLine() ?? throw new InvalidOperationException("The mock cluster did not start.");
        return new MockBroker(process, servers);
    }

    private static void Obey(KafkaMock cluster, string[] command)
    {
        switch (command)
        {
            case ["away"]: cluster.TakeAway(); break;
            case ["back"]: cluster.BringBack(); break;
            case ["slow", var milliseconds]: cluster.SetRoundTrip(TimeSpan.FromMilliseconds(Number(milliseconds))); break;
            case ["coordinator", var group, var broker]: cluster.MoveCoordinator(group, Number(broker)); break;
            case ["leader", var topic, var broker]: cluster.MoveLeader(topic, 0, Number(broker)); break;
            default: throw new ArgumentException($"The mock cluster knows no '{string.Join(' ', command)}'.");
        }
    }

    private static int Number(string text) => int.Parse(text, CultureInfo.InvariantCulture);

    public void Dispose()
    {
        _process.StandardInput.Close();
        if (!_process.WaitForExit(TimeSpan.FromSeconds(10))) _process.Kill();
        _process.Dispose();
    }
}
