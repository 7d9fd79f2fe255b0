using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Tests.Features;

public class QuantileSketchTests
{
    // As the sketch's own page says it.
    private const double StatedError = 0.02;

    [Theory]
    [InlineData("uniform", 5_000)]
    [InlineData("long tail", 5_000)]
    [InlineData("few values", 5_000)]
    [InlineData("rising", 5_000)]
    [InlineData("uniform", 300)]
    [InlineData("drifting", 12_000)]
    public void ShareBelow_ThousandStreams_IsWithinTheStatedErrorIn99Of100(string kind, int longest)
    {
        int within = 0;
        for (int run = 0; run < 1000; run++)
        {
            var random = new Random(run);
            var numbers = new double[random.Next(longest / 10, longest)];
            var sketch = new QuantileSketch();
            for (int i = 0; i < numbers.Length; i++)
            {
                numbers[i] = kind switch
                {
                    "uniform" => random.NextDouble(),
                    "long tail" => Math.Exp(5 * random.NextDouble() * random.NextDouble()) * random.Next(1, 100),
                    "few values" => random.Next(9),
                    "rising" => i,
                    _ => random.NextDouble() + 3.0 * i / numbers.Length,
                };
                sketch.Add(numbers[i]);
            }
            double number = numbers[random.Next(numbers.Length)];
            double exact = (numbers.Count(n => n < number) + 0.5 * numbers.Count(n => n == number)) / numbers.Length;
            if (Math.Abs(sketch.ShareBelow(number) - exact) <= StatedError) within++;
        }
        Assert.InRange(within, 990, 1000);
    }

    [Fact]
    public void ShareBelow_FirstNumbers_IsExact()
    {
        var sketch = new QuantileSketch();
        Assert.Equal(0.5, sketch.ShareBelow(7));
        var random = new Random(1);
        var numbers = new List<double>();
        for (int i = 0; i < 255; i++)
        {
            numbers.Add(random.Next(40));
            sketch.Add(numbers[^1]);
            double exact = (numbers.Count(n => n < 20) + 0.5 * numbers.Count(n => n == 20)) / numbers.Count;
            Assert.Equal(exact, sketch.ShareBelow(20), 1e-15);
        }
    }

    [Fact]
    public void SaveAndLoad_AtAnyMoment_GoesOnWithTheSameBits()
    {
        var random = new Random(2);
        var whole = new QuantileSketch();
        var resumed = new QuantileSketch();
        for (int i = 0; i < 30_000; i++)
        {
            double number = random.NextDouble();
            Assert.Equal(whole.ShareBelow(number), resumed.ShareBelow(number));
            whole.Add(number);
            resumed.Add(number);
            if (random.Next(500) > 0) continue;
            using var bytes = new MemoryStream();
            resumed.Save(new BinaryWriter(bytes));
            bytes.Position = 0;
            resumed = new QuantileSketch();
            resumed.Load(new BinaryReader(bytes));
        }
    }
}
