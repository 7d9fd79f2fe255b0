using BenchmarkDotNet.Attributes;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Benchmarks.Learning;

/// <summary>The elementary functions on every width, against those of the runtime. The times are those of one value.</summary>
public class LaneMathBenchmarks
{
    private const int Values = 4096;
    private readonly double[] _arguments = CreateArguments();
    private readonly double[] _results = new double[Values];

    [Benchmark(OperationsPerInvoke = Values, Baseline = true)]
    public void ExpOfRuntime()
    {
        for (int i = 0; i < Values; i++) _results[i] = Math.Exp(_arguments[i]);
    }

    [Benchmark(OperationsPerInvoke = Values)]
    public void ExpOfOne() => Exp<Lanes1>();

    [Benchmark(OperationsPerInvoke = Values)]
    public void ExpOfFour() => Exp<Lanes4>();

    [Benchmark(OperationsPerInvoke = Values)]
    public void ExpOfEight() => Exp<Lanes8>();

    [Benchmark(OperationsPerInvoke = Values)]
    public void LogOfRuntime()
    {
        for (int i = 0; i < Values; i++) _results[i] = Math.Log(Math.Abs(_arguments[i]));
    }

    [Benchmark(OperationsPerInvoke = Values)]
    public void LogOfOne() => Log<Lanes1>();

    [Benchmark(OperationsPerInvoke = Values)]
    public void LogOfEight() => Log<Lanes8>();

    [Benchmark(OperationsPerInvoke = Values)]
    public void SigmoidOfOne() => Sigmoid<Lanes1>();

    [Benchmark(OperationsPerInvoke = Values)]
    public void SigmoidOfEight() => Sigmoid<Lanes8>();

    private void Exp<T>() where T : struct, ILanes<T>
    {
        for (nuint i = 0; i < Values; i += (nuint)T.Width) LaneMath.Exp(T.Load(in _arguments[0], i)).Store(ref _results[0], i);
    }

    private void Log<T>() where T : struct, ILanes<T>
    {
        for (nuint i = 0; i < Values; i += (nuint)T.Width) LaneMath.Log(T.Abs(T.Load(in _arguments[0], i))).Store(ref _results[0], i);
    }

    private void Sigmoid<T>() where T : struct, ILanes<T>
    {
        for (nuint i = 0; i < Values; i += (nuint)T.Width) LaneMath.Sigmoid(T.Load(in _arguments[0], i)).Store(ref _results[0], i);
    }

    private static double[] CreateArguments()
    {
        var random = new Random(1);
        return [.. Enumerable.Range(0, Values).Select(_ => random.NextDouble() * 20 - 10)];
    }
}
