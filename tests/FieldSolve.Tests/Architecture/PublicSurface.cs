using System.Globalization;
using System.Reflection;
using System.Runtime.CompilerServices;

namespace FieldSolve.Tests.ArchitectureTests;

/// <summary>The public members of an assembly, one line each, in an order that does not depend on the machine.</summary>
internal static class PublicSurface
{
    private const BindingFlags Declared = BindingFlags.Public | BindingFlags.NonPublic | BindingFlags.Instance | BindingFlags.Static | BindingFlags.DeclaredOnly;

    /// <summary>Lists types and members; what the compiler adds to every record (equality, copies, ToString) is left out.</summary>
    public static IReadOnlyList<string> Of(Assembly assembly) =>
    [
        .. assembly.GetTypes().Where(IsSeen).SelectMany(t => Members(t).Select(m => $"{Name(t)}{m}")).Distinct().Order(StringComparer.Ordinal),
    ];

    // Nested types count when all around them are seen.
    private static bool IsSeen(Type type) =>
        type.IsPublic || (type.DeclaringType is { } outer && (type.IsNestedPublic || type.IsNestedFamily || type.IsNestedFamORAssem) && IsSeen(outer));

    private static IEnumerable<string> Members(Type type)
    {
        yield return $" : {Kind(type)}{Bases(type)}";
        if (type.IsEnum)
        {
            foreach (string name in Enum.GetNames(type))
            {
                yield return $".{name} = {Convert.ToInt64(Enum.Parse(type, name), CultureInfo.InvariantCulture).ToString(CultureInfo.InvariantCulture)}";
            }

            yield break;
        }

        if (typeof(Delegate).IsAssignableFrom(type))
        {
            MethodInfo invoke = type.GetMethod("Invoke")!;
            yield return $"({Parameters(invoke)}) -> {Name(invoke.ReturnType)}";
            yield break;
        }

        foreach (FieldInfo f in type.GetFields(Declared).Where(f => f.IsPublic || f.IsFamily || f.IsFamilyOrAssembly))
        {
            yield return $".{f.Name} -> {Name(f.FieldType)}{(f.IsLiteral ? " const" : f.IsInitOnly ? " readonly" : "")}";
        }

        foreach (ConstructorInfo c in type.GetConstructors(Declared).Where(c => IsOpen(c) && !IsGenerated(c)))
        {
            yield return $".new({Parameters(c)})";
        }

        foreach (PropertyInfo p in type.GetProperties(Declared).Where(p => p.GetAccessors(true).Any(IsOpen) && !IsGenerated(p) && p.Name != "EqualityContract"))
        {
            string index = p.GetIndexParameters().Length > 0 ? $"[{string.Join(", ", p.GetIndexParameters().Select(One))}]" : "";
            string get = p.GetMethod is { } g && IsOpen(g) ? "get; " : "";
            bool init = p.SetMethod?.ReturnParameter.GetRequiredCustomModifiers().Contains(typeof(IsExternalInit)) == true;
            string set = p.SetMethod is { } s && IsOpen(s) ? init ? "init; " : "set; " : "";
            yield return $".{p.Name}{index} {{ {get}{set}}} -> {Name(p.PropertyType)}";
        }

        foreach (MethodInfo m in type.GetMethods(Declared).Where(m => IsOpen(m) && !IsGenerated(m) && !(m.IsSpecialName && !m.Name.StartsWith("op_", StringComparison.Ordinal))))
        {
            string generic = m.IsGenericMethod ? $"<{string.Join(", ", m.GetGenericArguments().Select(Name))}>" : "";
            yield return $".{m.Name}{generic}({Parameters(m)}) -> {Name(m.ReturnType)}{(m.IsStatic ? " static" : m.IsAbstract && !type.IsInterface ? " abstract" : "")}";
        }
    }

    private static bool IsOpen(MethodBase m) => m.IsPublic || m.IsFamily || m.IsFamilyOrAssembly;

    private static bool IsGenerated(MemberInfo m) => m.IsDefined(typeof(CompilerGeneratedAttribute));

    private static string Kind(Type t) =>
        t.IsInterface ? "interface" : t.IsEnum ? "enum" : t.IsValueType ? "struct" : typeof(Delegate).IsAssignableFrom(t) ? "delegate"
        : t is { IsAbstract: true, IsSealed: true } ? "static class" : t.IsAbstract ? "abstract class" : t.IsSealed ? "sealed class" : "class";

    private static string Bases(Type t)
    {
        IEnumerable<Type> all = t.BaseType is { } b && b != typeof(object) && !t.IsValueType && !typeof(Delegate).IsAssignableFrom(t) ? [b] : [];
        string[] names = [.. all.Concat(t.IsEnum ? [] : t.GetInterfaces().Where(IsOrdinary)).Select(Name).Order(StringComparer.Ordinal)];
        return names.Length == 0 ? "" : " of " + string.Join(", ", names);
    }

    // A record's IEquatable goes without saying.
    private static bool IsOrdinary(Type t) => t.IsVisible && !(t.IsGenericType && t.GetGenericTypeDefinition() == typeof(IEquatable<>));

    private static string Parameters(MethodBase m) => string.Join(", ", m.GetParameters().Select(One));

    private static string One(ParameterInfo p)
    {
        string way = p.IsOut ? "out " : p.ParameterType.IsByRef ? p.IsIn ? "in " : "ref " : "";
        return $"{way}{Name(p.ParameterType.IsByRef ? p.ParameterType.GetElementType()! : p.ParameterType)} {p.Name}{(p.IsOptional ? " = default" : "")}";
    }

    private static string Name(Type t)
    {
        if (t.IsGenericParameter)
        {
            return t.Name;
        }

        if (t.IsArray)
        {
            return $"{Name(t.GetElementType()!)}[{new string(',', t.GetArrayRank() - 1)}]";
        }

        if (t.IsPointer)
        {
            return Name(t.GetElementType()!) + "*";
        }

        string full = t.FullName ?? $"{t.Namespace}.{t.Name}";
        string own = (full.Contains('[', StringComparison.Ordinal) ? full[..full.IndexOf('[', StringComparison.Ordinal)] : full).Replace('+', '.');
        if (own.StartsWith("System.", StringComparison.Ordinal))
        {
            own = own[(own.LastIndexOf('.') + 1)..];
        }

        return t.IsGenericType ? $"{own.Split('`')[0]}<{string.Join(", ", t.GetGenericArguments().Select(Name))}>" : own;
    }
}
