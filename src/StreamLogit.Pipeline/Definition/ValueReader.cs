using System.Collections.Immutable;
using System.Globalization;
using System.Text.Json;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Reads one value of a definition as what its key wants. Where it is something else, adds an error and gives null.</summary>
internal sealed class ValueReader(PositionedValue value, string path, DefinitionErrors errors)
{
    public PositionedValue Value => value;

    public string Path => path;

    public void Error(string message) => errors.Add(value.Place, path, message);

    /// <summary>A string that is not empty.</summary>
    public string? Text()
    {
        if (value.Kind == JsonValueKind.String && value.Text.Length > 0) return value.Text;
        return Wanted<string>(value.Kind == JsonValueKind.String ? "a string that is not empty" : "a string");
    }

    /// <summary>The path of a field in a record.</summary>
    public string? FieldPath()
    {
        string? field = Text();
        if (field is null || field.Split('.').All(part => part.Length > 0)) return field;
        return Wanted<string>("the path of a field, nested names joined by single dots, as \"payment.amount\"");
    }

    public bool? Flag() => value.Kind switch
    {
        JsonValueKind.True => true,
        JsonValueKind.False => false,
        _ => WantedValue<bool>("true or false"),
    };

    public int? Whole(int minimum, int maximum)
    {
        bool right = TryWhole(out decimal number) && number >= minimum && number <= maximum;
        return right ? (int)number : WantedValue<int>($"a whole number from {minimum} to {maximum}");
    }

    public ulong? Unsigned()
    {
        bool right = TryWhole(out decimal number) && number is >= 0 and <= ulong.MaxValue;
        return right ? (ulong)number : WantedValue<ulong>($"a whole number from 0 to {ulong.MaxValue}");
    }

    public int? PowerOfTwo(int minimumExponent, int maximumExponent)
    {
        int minimum = 1 << minimumExponent, maximum = 1 << maximumExponent;
        bool right = TryWhole(out decimal number) && number >= minimum && number <= maximum && int.IsPow2((int)number);
        return right ? (int)number : WantedValue<int>($"a power of two from {minimum} to {maximum}");
    }

    public double? Number(NumberRange range)
    {
        if (value.Kind != JsonValueKind.Number) return WantedValue<double>(range.InWords);
        double number = double.Parse(value.Text, NumberStyles.Float, CultureInfo.InvariantCulture);
        if (!double.IsFinite(number)) return WantedValue<double>($"{range.InWords} that a double can hold, at most {double.MaxValue}");
        if (number == 0 && !NumberText.IsZero(value.Text)) return WantedValue<double>($"{range.InWords} that a double can hold, at least {double.Epsilon}");
        return range.Contains(number) ? number + 0.0 : WantedValue<double>(range.InWords); // + 0.0 makes 0 of -0: one number, one name
    }

    /// <summary>A duration in microseconds.</summary>
    public long? Duration(long minimumMicroseconds, long maximumMicroseconds)
    {
        if (value.Kind == JsonValueKind.String && DurationText.TryParse(value.Text, out long microseconds)
            && microseconds >= minimumMicroseconds && microseconds <= maximumMicroseconds)
        {
            return microseconds;
        }
        return WantedValue<long>(
            $"a duration from {DurationText.Format(minimumMicroseconds)} to {DurationText.Format(maximumMicroseconds)}, written as {DurationText.Form}");
    }

    /// <summary>One of a few names.</summary>
    public T? OneOf<T>(params ReadOnlySpan<(string Name, T Meaning)> known) where T : struct
    {
        foreach (var (name, meaning) in known)
        {
            if (value.Kind == JsonValueKind.String && value.Text == name) return meaning;
        }
        var names = new List<string>();
        foreach (var (name, _) in known) names.Add(name);
        UnknownName(names);
        return null;
    }

    /// <summary>Adds the error that the value is none of the names.</summary>
    public void UnknownName(IReadOnlyCollection<string> known)
    {
        string hint = value.Kind == JsonValueKind.String ? NearestName.Hint(value.Text, known) : "";
        Error($"expected one of {Quoted.List(known)}, found {value.Describe()}{hint}");
    }

    /// <summary>The items of a list that is not empty and not longer than a bound.</summary>
    public ImmutableArray<ValueReader>? List(string what, int most)
    {
        if (value.Kind != JsonValueKind.Array || value.Items.IsEmpty) return WantedValue<ImmutableArray<ValueReader>>($"a list of {what}, at least one");
        if (value.Items.Length > most) return WantedValue<ImmutableArray<ValueReader>>($"at most {most} {what}", $"{value.Items.Length}");
        return [.. value.Items.Select((item, index) => new ValueReader(item, DefinitionPath.Item(path, index), errors))];
    }

    /// <summary>The items of a list that is not empty, or the value itself where it is not a list.</summary>
    public ImmutableArray<ValueReader>? OneOrList(string what, int most) => value.Kind == JsonValueKind.Array ? List(what, most) : [this];

    public ObjectReader? Object()
    {
        if (value.Kind == JsonValueKind.Object) return new ObjectReader(value, path, errors);
        return Wanted<ObjectReader>("an object");
    }

    private bool TryWhole(out decimal number)
    {
        number = 0;
        return value.Kind == JsonValueKind.Number && NumberText.TryWhole(value.Text, out number);
    }

    private T? Wanted<T>(string what) where T : class
    {
        Error($"expected {what}, found {value.Describe()}");
        return null;
    }

    private T? WantedValue<T>(string what, string? found = null) where T : struct
    {
        Error($"expected {what}, found {found ?? value.Describe()}");
        return null;
    }
}
